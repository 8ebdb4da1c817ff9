#ifndef ALARMS_H
#define ALARMS_H

#include <stdint.h>

/* tank and battery: compared with the scaled result */
#define TANK_LOW_MM     800u
#define BATT_STOP_MV    14400u      /* charger off */

/* pump: compared with the raw code, every millisecond; 1.0 A forward */
#define PUMP_TRIP_CODE  3413u

enum {
    ALARM_TANK_LOW   = 1 << 0,
    ALARM_BATT_FULL  = 1 << 1,
    ALARM_PUMP_TRIP  = 1 << 2
};

uint8_t alarms_slow(void);
void    alarms_fast(void);

#endif
