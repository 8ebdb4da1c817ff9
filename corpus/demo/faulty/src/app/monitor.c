/* Trout hatchery water monitor: main loop. */
#include "readings.h"
#include "alarms.h"
#include "../drivers/drivers.h"
#include "../hal/acq.h"
#include "../hal/io.h"
#include "../hal/par8.h"
#include "logger.h"             /* from the radio supplier's kit */

struct readings hatchery;

static void sample_levels(void)
{
    hatchery.tank_mm = tank_mm(acq_code(IN_TANK));
    hatchery.sump_cm = sump_cm(acq_code(IN_SUMP));
    hatchery.inflow_kpa_x10 = inflow_kpa_x10(acq_code(IN_INFLOW));
}

static void sample_water(void)
{
    hatchery.oxygen_kpa_x100 = oxygen_kpa_x100();
    hatchery.ph_x100 = ph_x100();
    hatchery.turbidity_ntu = turbidity_ntu();
    hatchery.water_temp_x10 = water_temp_x10(acq_code(IN_TEMP));
    hatchery.light_lx = light_lx();
}

static void sample_power(void)
{
    hatchery.battery_mv = battery_mv();
    hatchery.supply_mv = supply_mv();
    hatchery.rail12_mv = rail12_mv();
    hatchery.pump_ma = pump_ma(acq_code(IN_PUMP));
    hatchery.aerator_ma = aerator_ma();
}

int main(void)
{
    acq_init();
    par8_start();

    for (;;) {
        logger_wait_second();
        sample_levels();
        sample_water();
        sample_power();
        hatchery.alarms = alarms_slow();
        if (hatchery.alarms & ALARM_BATT_FULL)
            io_charger_off();
        logger_send(&hatchery, sizeof hatchery);
    }
}
