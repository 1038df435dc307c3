#ifndef FIELD_VECTOR_H
#define FIELD_VECTOR_H

/* Compiled twice, for plain x86-64 and for processors with AVX2; the loader picks.  Products and
 * sums are not fused (-std=c17), so both give the same bits. */
#if defined(__x86_64__) && defined(__GNUC__) && !defined(__clang__) &&                             \
    !defined(__SANITIZE_ADDRESS__)
#define VECTOR_CLONES __attribute__((target_clones("avx2", "default")))
#else
#define VECTOR_CLONES
#endif

#endif
