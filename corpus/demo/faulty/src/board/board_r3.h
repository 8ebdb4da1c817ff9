/*
 * Hatchery monitor, revision 3. Values from the schematic, sheet 2 of 4.
 */
#ifndef BOARD_R3_H
#define BOARD_R3_H

/* U7, on VREF+ of the controller */
#define ACQ_VREF_MV     3000

/* tank level: 4-20 mA transmitter, 0..2.5 m, into R41 */
#define LOOP_SHUNT_OHM  100
#define LOOP_ZERO_UA    4000
#define LOOP_UA_PER_CM  64

/* dissolved oxygen: galvanic probe 4 mV/kPa, amplifier 10k/1k */
#define O2_AMP_GAIN     11
#define O2_UV_PER_KPA   4000

/* feeder battery: R21 100k over R22 10k */
#define BATT_DIV        10

/* circulation pump: R31 and its amplifier, zero at half of the 3.3 V rail */
#define PUMP_SHUNT_MOHM 50
#define PUMP_GAIN       20
#define PUMP_ZERO_DMV   16500       /* 100 uV */

/* 12 V rail: R51 over R52 */
#define RAIL_R_TOP_K    20
#define RAIL_R_BOT_K    10

/* aerator motor: R61 and its amplifier */
#define AER_SHUNT_MOHM  100
#define AER_GAIN        20

#endif
