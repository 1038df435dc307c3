#ifndef REPORT_PDF_REFERENCES_H
#define REPORT_PDF_REFERENCES_H

#include <stddef.h>

/* cairo 1.16 now and then numbers an object that it never writes; the cross-reference table then
 * points into the middle of another one and careful readers call the file damaged (ISO 32000-1,
 * 7.5.4).  Such entries are marked free, in place: the length stays.  Files whose table is a stream
 * (newer cairo) are left as they are.  Returns how many entries were freed. */
size_t pdf_references_repair(char *bytes, size_t length);

#endif
