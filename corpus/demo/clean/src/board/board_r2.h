/* Hatchery monitor, revision 2 (prototype, 2.5 V reference). Not built any more. */
#ifndef BOARD_R2_H
#define BOARD_R2_H

#define ACQ_VREF_MV     2500

#define LOOP_SHUNT_OHM  100
#define LOOP_ZERO_UA    4000

#define O2_AMP_GAIN     21
#define O2_UV_PER_KPA   4000

#define BATT_DIV        6           /* 51k over 10k, a bit off */

#define PUMP_SHUNT_MOHM 100
#define PUMP_GAIN       10
#define PUMP_ZERO_DMV   12500

#define RAIL_R_TOP_K    30
#define RAIL_R_BOT_K    10

#endif
