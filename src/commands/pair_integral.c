/* SPDX-License-Identifier: GPL-3.0-or-later */
/*
 * Averages of the integrals instead of the state: the specific volume of every member, and its departure from
 * a common reference state shared out between heat and salt, are averaged with the weights of the epoch.
 *
 * With the reference r and a member m, symmetric attribution gives the member's thermosteric part as the mean
 * of v(Sr,Tm) - v(Sr,Tr) and v(Sm,Tm) - v(Sm,Tr), so that both parts sum to v(m) - v(r) and the change of
 * their means to the change of the mean volume.  r is the middle of both averaged states (the earlier one for
 * `earlier`).
 */
#include "commands/pair_inside.h"

#include "base/checked.h"

#include <math.h>
#include <stdlib.h>
#include <string.h>

enum { VOLUME, THERMOSTERIC, HALOSTERIC, PARTS };

typedef struct integral_work {
    stericol_pair_slab *slab;
    size_t epoch, member;
    double *reference_salinity, *reference_temperature;
    double *salinity, *temperature;            /* of the member */
    double *month[PARTS], *month_weight;       /* running sums within a calendar month */
    double *whole[2][PARTS], *whole_weight[2]; /* over the months, of each epoch */
    size_t *valid;                             /* members that count, per point */
} integral_work;

static bool allocate(integral_work *work, size_t room)
{
    bool whole = true;
    double **arrays[] = {&work->reference_salinity, &work->reference_temperature, &work->salinity,
                         &work->temperature,        &work->month_weight,          &work->whole_weight[0],
                         &work->whole_weight[1]};

    for (size_t i = 0; i < sizeof arrays / sizeof arrays[0]; i++)
        whole = (*arrays[i] = stericol_new_doubles(room)) != NULL && whole;
    for (size_t p = 0; p < PARTS; p++) {
        whole = (work->month[p] = stericol_new_doubles(room)) != NULL && whole;
        for (size_t e = 0; e < 2; e++)
            whole = (work->whole[e][p] = stericol_new_doubles(room)) != NULL && whole;
    }
    work->valid = stericol_new_array(room, sizeof *work->valid);
    return whole && work->valid != NULL;
}

static void release(integral_work *work)
{
    free(work->reference_salinity);
    free(work->reference_temperature);
    free(work->salinity);
    free(work->temperature);
    free(work->month_weight);
    free(work->valid);
    for (size_t e = 0; e < 2; e++)
        free(work->whole_weight[e]);
    for (size_t p = 0; p < PARTS; p++) {
        free(work->month[p]);
        for (size_t e = 0; e < 2; e++)
            free(work->whole[e][p]);
    }
}

/* Which epoch is read: a scenario's second state is its first, changed member by member. */
static size_t read_epoch(const integral_work *work)
{
    return work->slab->work->pair->kind == STERICOL_PAIR_SCENARIO ? 0 : work->epoch;
}

static void set_reference(integral_work *work, size_t room)
{
    const stericol_pair_slab *slab = work->slab;
    bool earlier = slab->work->pair->column.attribution == STERICOL_ATTRIBUTION_EARLIER;

    for (size_t i = 0; i < room; i++) {
        double s1 = slab->salinity[0][i], s2 = slab->salinity[1][i];
        double t1 = slab->temperature[0][i], t2 = slab->temperature[1][i];

        work->reference_salinity[i] = earlier ? s1 : 0.5 * (s1 + s2);
        work->reference_temperature[i] = earlier ? t1 : 0.5 * (t1 + t2);
    }
}

/* v of a piece at salinities s and temperatures t. */
static void volumes(const stericol_pair_work *work, const stericol_pair_piece *piece, const double *s,
                    const double *t, double *v)
{
    const stericol_water *water = work->pair->column.water;

    if (piece->pressures != NULL)
        stericol_volume_points(water, piece->pressures, piece->count, s, t, v);
    else
        stericol_volume_row(water, piece->pressure, piece->count, s, t, v);
}

static void slopes(const stericol_pair_work *work, const stericol_pair_piece *piece, const double *s,
                   const double *t, double *v, double *v_t, double *v_s)
{
    const stericol_water *water = work->pair->column.water;

    if (piece->pressures != NULL)
        stericol_volume_points_derivatives(water, piece->pressures, piece->count, s, t, v, v_t, v_s);
    else
        stericol_volume_row_derivatives(water, piece->pressure, piece->count, s, t, v, v_t, v_s);
}

/* The member's volume and its two parts relative to the reference. */
static void parts_of_member(const stericol_pair_work *work, const stericol_pair_piece *piece,
                            const double *sr, const double *tr, const double *sm, const double *tm,
                            double part[PARTS][STERICOL_PAIR_STRIP])
{
    double reference[STERICOL_PAIR_STRIP], warm[STERICOL_PAIR_STRIP], salt[STERICOL_PAIR_STRIP];
    stericol_attribution attribution = work->pair->column.attribution;

    volumes(work, piece, sm, tm, part[VOLUME]);
    if (attribution == STERICOL_ATTRIBUTION_LINEAR) {
        slopes(work, piece, sr, tr, reference, warm, salt);
        for (size_t i = 0; i < piece->count; i++) {
            part[THERMOSTERIC][i] = warm[i] * (tm[i] - tr[i]);
            part[HALOSTERIC][i] = salt[i] * (sm[i] - sr[i]);
        }
        return;
    }
    volumes(work, piece, sr, tr, reference);
    volumes(work, piece, sr, tm, warm);
    volumes(work, piece, sm, tr, salt);
    for (size_t i = 0; i < piece->count; i++) {
        double v = part[VOLUME][i];
        bool symmetric = attribution == STERICOL_ATTRIBUTION_SYMMETRIC;

        part[THERMOSTERIC][i] =
            symmetric ? 0.5 * ((warm[i] - reference[i]) + (v - salt[i])) : warm[i] - reference[i];
        part[HALOSTERIC][i] =
            symmetric ? 0.5 * ((salt[i] - reference[i]) + (v - warm[i])) : salt[i] - reference[i];
    }
}

typedef struct member_piece {
    integral_work *work;
    size_t level;
} member_piece;

static void add_piece(void *argument, const stericol_pair_piece *piece, size_t index)
{
    integral_work *work = ((member_piece *)argument)->work;
    const stericol_pair_slab *slab = work->slab;
    size_t at = ((member_piece *)argument)->level * slab->count + index;
    size_t epoch = read_epoch(work);
    double length = stericol_epoch_member_at(slab->work->pair->epochs[epoch].epoch, work->member)->length;
    double part[PARTS][STERICOL_PAIR_STRIP];

    stericol_pair_convert_piece(slab->work, epoch, piece, work->salinity + at, work->temperature + at);
    if (work->epoch != epoch)
        (void)stericol_pair_change_piece(slab->work, piece, work->salinity + at, work->temperature + at,
                                         work->salinity + at, work->temperature + at);
    parts_of_member(slab->work, piece, work->reference_salinity + at, work->reference_temperature + at,
                    work->salinity + at, work->temperature + at, part);
    for (size_t i = 0; i < piece->count; i++) {
        /* Without a reference the other epoch has no mean state: no reason to find this one short too. */
        bool shared = isfinite(work->reference_salinity[at + i] + work->reference_temperature[at + i]);

        if (!isfinite(work->salinity[at + i]) || !isfinite(work->temperature[at + i]) ||
            !isfinite(part[VOLUME][i]) || (shared && !isfinite(part[THERMOSTERIC][i])))
            continue;
        for (size_t p = 0; p < PARTS; p++)
            work->month[p][at + i] += length * part[p][i];
        work->month_weight[at + i] += length;
        work->valid[at + i]++;
    }
}

static void add_member_range(void *argument, size_t from, size_t to, size_t worker)
{
    integral_work *work = argument;

    (void)worker;
    for (size_t k = 0; k < work->slab->levels; k++)
        stericol_pair_pieces(work->slab, k, from, to, add_piece, &(member_piece){work, k});
}

static void clear_month(integral_work *work, size_t room)
{
    for (size_t p = 0; p < PARTS; p++)
        memset(work->month[p], 0, room * sizeof(double));
    memset(work->month_weight, 0, room * sizeof(double));
}

/* A calendar month (or, without months, everything so far) enters the epoch with its own weight. */
static void close_month(integral_work *work, size_t room, double month_weight)
{
    for (size_t i = 0; i < room; i++) {
        double weight = month_weight > 0.0 ? month_weight : work->month_weight[i];

        if (!(work->month_weight[i] > 0.0))
            continue;
        for (size_t p = 0; p < PARTS; p++)
            work->whole[work->epoch][p][i] += weight * (work->month[p][i] / work->month_weight[i]);
        work->whole_weight[work->epoch][i] += weight;
    }
    clear_month(work, room);
}

static stericol_status average_epoch(integral_work *work, size_t room)
{
    stericol_pair_slab *slab = work->slab;
    const stericol_pair_epoch *source = &slab->work->pair->epochs[read_epoch(work)];
    size_t members = stericol_epoch_member_count(source->epoch);
    bool reads_salinity = source->salinity_source == STERICOL_SALINITY_FROM_FILE;
    /* As in the average of states: half of an even number of members is enough whatever the rounding. */
    double least = slab->work->pair->least_times * (double)members - 1e-9;

    for (size_t p = 0; p < PARTS; p++)
        memset(work->whole[work->epoch][p], 0, room * sizeof(double));
    memset(work->whole_weight[work->epoch], 0, room * sizeof(double));
    memset(work->valid, 0, room * sizeof *work->valid);
    clear_month(work, room);
    for (size_t m = 0; m < members; m++) {
        const stericol_epoch_member *member = stericol_epoch_member_at(source->epoch, m);
        stericol_executor *executor = slab->work->executor;
        stericol_status status;

        status = stericol_epoch_load_member(slab->work->context, source->epoch, m, slab->level0, slab->levels,
                                            slab->row0, slab->rows, work->temperature,
                                            reads_salinity ? work->salinity : NULL, NULL);
        if (status != STERICOL_OK)
            return status;
        work->member = m;
        executor->run(executor, slab->count, 2 * STERICOL_PAIR_STRIP, add_member_range, work);
        if (m + 1 == members || stericol_epoch_member_at(source->epoch, m + 1)->month != member->month)
            close_month(work, room, member->month_weight);
    }
    for (size_t i = 0; i < room; i++)
        if (!(work->whole_weight[work->epoch][i] > 0.0) || (double)work->valid[i] < least)
            work->whole_weight[work->epoch][i] = NAN;
    return STERICOL_OK;
}

static void give_means(integral_work *work, size_t room)
{
    stericol_pair_slab *slab = work->slab;

    for (size_t i = 0; i < room; i++) {
        double mean[2][PARTS];

        for (size_t e = 0; e < 2; e++)
            for (size_t p = 0; p < PARTS; p++)
                mean[e][p] = work->whole[e][p][i] / work->whole_weight[e][i];
        slab->averaged[0][i] = mean[0][VOLUME];
        slab->averaged[1][i] = mean[1][VOLUME];
        slab->averaged[2][i] = mean[1][THERMOSTERIC] - mean[0][THERMOSTERIC];
        slab->averaged[3][i] = mean[1][HALOSTERIC] - mean[0][HALOSTERIC];
        /* A point that has a mean state has a mean integral, but for values that only conversion makes
         * unusable. */
        for (size_t e = 0; e < 2; e++)
            if (isnan(mean[e][VOLUME]) && isfinite(slab->temperature[e][i]))
                slab->temperature[e][i] = NAN;
    }
}

stericol_status stericol_pair_average_integrals(stericol_pair_slab *slab)
{
    integral_work work = {.slab = slab};
    size_t room = slab->levels * slab->count;
    stericol_status status = STERICOL_OK;

    if (!allocate(&work, room)) {
        status =
            stericol_fail_memory(slab->work->context, room * sizeof(double), "the averages of integrals");
        goto done;
    }
    set_reference(&work, room);
    for (size_t e = 0; e < 2 && status == STERICOL_OK; e++) {
        work.epoch = e;
        status = average_epoch(&work, room);
    }
    if (status == STERICOL_OK)
        give_means(&work, room);
done:
    release(&work);
    return status;
}
