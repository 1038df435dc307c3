#include "fronts.h"

#include <math.h>
#include <stdint.h>
#include <string.h>

enum { MOST = LINE_MOST_CONDUCTORS };

/* Modes whose delays agree to this are one direction of the lattice: a homogeneous line of eight
 * conductors has one front per passage, not a combinatorial number. */
static const double SAME_DELAY = 1e-13;

struct lattice {
    size_t count, groups;
    size_t group_of[MOST];
    double delay[MOST]; /* per group */
    unsigned bits;      /* of the key, per group */
    size_t orders;
    double unit[MOST]; /* volts per unit of a modal wave, at most */
    const struct end_system *near, *far;
    const struct fronts_limit *limit;
};

/* The fronts of one number of passages, ascending by key = packed passage counts. */
struct level {
    uint64_t *key;
    size_t *front; /* index into fronts */
    size_t count;
    size_t room;
};

static struct lattice lattice_of(const struct line_modes *modes, double length,
                                 const struct end_system *near, const struct end_system *far,
                                 const struct fronts_limit *limit) {
    struct lattice lattice = {.count = modes->count, .near = near, .far = far, .limit = limit};
    for (size_t m = 0; m < modes->count; m++) {
        double delay = modes->slowness[m] * length;
        if (m == 0 || delay - lattice.delay[lattice.groups - 1] > SAME_DELAY * delay)
            lattice.delay[lattice.groups++] = delay;
        lattice.group_of[m] = lattice.groups - 1;
        for (size_t i = 0; i < modes->count; i++)
            lattice.unit[m] = fmax(lattice.unit[m], fabs(modes->voltage[i * modes->count + m]));
    }
    lattice.bits = lattice.groups == 1 ? 63 : (unsigned)(64 / lattice.groups);
    lattice.orders = near->states + far->states > 0 ? FRONT_ORDERS : 1;
    return lattice;
}

static bool level_reserve(struct level *level, size_t room, struct arena *arena,
                          struct error *error) {
    if (room <= level->room)
        return true;
    level->key = arena_new(arena, 2 * room, uint64_t, error);
    level->front = arena_new(arena, 2 * room, size_t, error);
    level->room = 2 * room;
    return level->key != NULL && level->front != NULL;
}

static bool fronts_reserve(struct fronts *fronts, size_t room, struct arena *arena,
                           struct error *error) {
    if (room <= fronts->room)
        return true;
    struct front *more = arena_new(arena, 2 * room, struct front, error);
    if (more == NULL)
        return false;
    if (fronts->count > 0)
        memcpy(more, fronts->front, fronts->count * sizeof *more);
    fronts->front = more;
    fronts->room = 2 * room;
    return true;
}

static bool front_take(const struct lattice *lattice, struct arena *arena, struct front *front,
                       struct error *error) {
    size_t jumps = lattice->orders * lattice->count;
    const struct end_system *end = front->near ? lattice->near : lattice->far;
    double *memory = arena_new(arena, 3 * jumps + lattice->orders * end->states, double, error);
    if (memory == NULL)
        return false;
    front->wave = memory;
    front->leaving = memory + jumps;
    front->voltage = memory + 2 * jumps;
    front->state = memory + 3 * jumps;
    return true;
}

static double row_times(const double *row, const double *vector, size_t count) {
    double sum = 0;
    for (size_t k = 0; k < count; k++)
        sum += row[k] * vector[k];
    return sum;
}

/* Jumps of each derivative follow from those of the one below: x is continuous, dx/dt jumps by
 * B b + Be e, the next derivative by A times that, and so on. */
static void scatter(const struct lattice *lattice, double emf, struct front *front) {
    const struct end_system *end = front->near ? lattice->near : lattice->far;
    size_t count = lattice->count, states = end->states;
    double state[MOST] = {0}, next[MOST];
    for (size_t p = 0; p < lattice->orders; p++) {
        double e = p == 0 ? emf : 0;
        const double *wave = front->wave + p * count;
        for (size_t i = 0; i < count; i++) {
            front->voltage[p * count + i] =
                row_times(end->voltage_of_state + i * states, state, states) +
                row_times(end->voltage_of_wave + i * count, wave, count) +
                end->voltage_of_emf[i] * e;
            front->leaving[p * count + i] =
                row_times(end->leaving_of_state + i * states, state, states) +
                row_times(end->leaving_of_wave + i * count, wave, count) +
                end->leaving_of_emf[i] * e;
        }
        for (size_t i = 0; i < states; i++)
            next[i] = row_times(end->state + i * states, state, states) +
                      row_times(end->state_of_wave + i * count, wave, count) +
                      end->state_of_emf[i] * e;
        memcpy(state, next, states * sizeof *state);
        memcpy(front->state + p * states, next, states * sizeof *next);
    }
}

/* The largest jump of a front and the last term of its power series, both over `scale`. */
struct strength {
    double best, last;
};

static struct strength strength_of(const struct lattice *lattice, const double *jumps) {
    double factor = 1;
    struct strength found = {0};
    for (size_t p = 0; p < lattice->orders; p++) {
        double largest = 0;
        for (size_t m = 0; m < lattice->count; m++)
            largest =
                fmax(largest, factor * lattice->unit[m] * fabs(jumps[p * lattice->count + m]));
        factor *= lattice->limit->scale / (double)(p + 1);
        found.best = fmax(found.best, largest);
        found.last = p + 1 == FRONT_ORDERS ? largest : 0;
    }
    return found;
}

/* Late fronts of capacitive ends oscillate faster and faster; once their power series no longer
 * converges within `scale` they are left to the grid, which blurs them within a step: a wrong
 * series does more harm than none.  One passage is followed or left as a whole: crosstalk is the
 * small difference of modes, and to follow one and blur the other would drown it. */
static bool converges(const struct lattice *lattice, const struct strength *level) {
    return lattice->orders == 1 || level->last <= lattice->limit->converged * level->best;
}

static double time_of(const struct lattice *lattice, uint64_t key) {
    double time = 0;
    for (size_t g = 0; g < lattice->groups; g++) {
        uint64_t mask = (UINT64_C(1) << lattice->bits) - 1;
        time += (double)(key >> (g * lattice->bits) & mask) * lattice->delay[g];
    }
    return time;
}

/* The next front in key order, fed by every group whose predecessor exists; false when there is
 * none left. */
static bool merge_one(const struct lattice *lattice, const struct level *level,
                      const struct fronts *fronts, size_t *head, uint64_t *key) {
    *key = UINT64_MAX;
    for (size_t g = 0; g < lattice->groups; g++)
        if (head[g] < level->count) {
            uint64_t candidate = level->key[head[g]] + (UINT64_C(1) << (g * lattice->bits));
            *key = candidate < *key ? candidate : *key;
        }
    if (*key == UINT64_MAX)
        return false;
    struct front *front = &fronts->front[fronts->count];
    memset(front->wave, 0, lattice->orders * lattice->count * sizeof(double));
    for (size_t g = 0; g < lattice->groups; g++) {
        if (head[g] >= level->count ||
            level->key[head[g]] + (UINT64_C(1) << (g * lattice->bits)) != *key)
            continue;
        const struct front *from = &fronts->front[level->front[head[g]++]];
        for (size_t m = 0; m < lattice->count; m++)
            if (lattice->group_of[m] == g)
                for (size_t p = 0; p < lattice->orders; p++)
                    front->wave[p * lattice->count + m] = from->leaving[p * lattice->count + m];
    }
    return true;
}

static bool next_slot(const struct lattice *lattice, struct fronts *fronts, bool near,
                      struct arena *arena, struct error *error) {
    struct front *front = &fronts->front[fronts->count];
    front->near = near;
    return front->wave != NULL || front_take(lattice, arena, front, error);
}

/* Every front of `level` goes on in each group of modes; the successors along one group keep the
 * order of their keys, so the next level is a merge of `groups` sorted lists. */
static bool next_level(const struct lattice *lattice, const struct level *level, bool near,
                       struct fronts *fronts, struct arena *arena, struct level *next,
                       struct error *error) {
    size_t head[MOST] = {0}, before = fronts->count;
    uint64_t key = 0;
    struct strength strongest = {0};
    next->count = 0;
    if (!level_reserve(next, lattice->groups * level->count, arena, error) ||
        !fronts_reserve(fronts, fronts->count + lattice->groups * level->count + 1, arena, error))
        return false;
    for (;;) {
        if (!next_slot(lattice, fronts, near, arena, error))
            return false;
        if (!merge_one(lattice, level, fronts, head, &key))
            break;
        struct front *front = &fronts->front[fronts->count];
        struct strength strength = strength_of(lattice, front->wave);
        strongest.best = fmax(strongest.best, strength.best);
        strongest.last = fmax(strongest.last, strength.last);
        front->time = time_of(lattice, key);
        if (front->time > lattice->limit->latest || strength.best <= lattice->limit->smallest)
            continue;
        scatter(lattice, 0, front);
        next->key[next->count] = key;
        next->front[next->count++] = fronts->count++;
        fronts->front[fronts->count].wave = NULL;
    }
    if (!converges(lattice, &strongest) || strongest.best < lattice->limit->weakest) {
        fronts->count = before;
        next->count = 0;
    }
    /* The slot left over belongs to this level's kind of end. */
    fronts->front[fronts->count].wave = NULL;
    return true;
}

bool fronts_follow(const struct line_modes *modes, double length, const struct end_system *near,
                   const struct end_system *far, const struct fronts_limit *limit,
                   struct arena *arena, struct fronts *fronts, struct error *error) {
    struct lattice lattice = lattice_of(modes, length, near, far, limit);
    struct level level = {0}, next = {0};
    struct fronts followed = {.orders = lattice.orders, .complete_until = INFINITY};
    if (!fronts_reserve(&followed, 64, arena, error) || !level_reserve(&level, 1, arena, error))
        return false;
    followed.front[0].near = true;
    if (!front_take(&lattice, arena, &followed.front[0], error))
        return false;
    scatter(&lattice, 1, &followed.front[0]);
    followed.count = level.count = 1;
    uint64_t passages = 0, most_passages = (UINT64_C(1) << lattice.bits) - 2;
    while (level.count > 0 && passages < most_passages &&
           followed.count + lattice.groups * level.count < limit->most) {
        passages++;
        bool near_next = passages % 2 == 0;
        if (!next_level(&lattice, &level, near_next, &followed, arena, &next, error))
            return false;
        for (size_t k = 0; k < level.count && next.count == 0; k++)
            followed.front[level.front[k]].last = true;
        struct level swap = level;
        level = next;
        next = swap;
    }
    for (size_t k = 0; k < level.count; k++)
        followed.front[level.front[k]].last = true;
    if (level.count > 0)
        followed.complete_until = lattice.delay[0] * (double)(passages + 1);
    *fronts = followed;
    return true;
}
