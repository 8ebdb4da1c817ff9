#include "alarms.h"
#include "readings.h"
#include "../hal/acq.h"
#include "../hal/io.h"

static volatile uint8_t pump_tripped;

uint8_t alarms_slow(void)
{
    uint8_t a = 0;

    if (hatchery.tank_mm < TANK_LOW_MM)
        a |= ALARM_TANK_LOW;
    if (hatchery.battery_mv >= BATT_STOP_MV)
        a |= ALARM_BATT_FULL;
    if (pump_tripped)
        a |= ALARM_PUMP_TRIP;
    return a;
}

/* from the 1 ms tick */
void alarms_fast(void)
{
    if (acq_code(IN_PUMP) > PUMP_TRIP_CODE) {
        io_pump_off();
        pump_tripped = 1;
    }
}
