/* The layout of data that is computed several points at a time: see base/lanes.h. */
#ifndef ANB_BASE_GROUP_H
#define ANB_BASE_GROUP_H

enum {
    ANB__LANES = 8,                   /* points of a group */
    ANB__GROUP = 2 * ANB__LANES,      /* doubles of a complex quantity of a group: re[8], im[8] */
    ANB__ALIGNMENT = 64               /* bytes */
};

#endif
