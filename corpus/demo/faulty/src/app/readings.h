/* What the monitor shows and logs, once a second. */
#ifndef READINGS_H
#define READINGS_H

#include <stdint.h>

struct readings {
    uint32_t tank_mm;
    uint8_t  sump_cm;
    uint32_t oxygen_kpa_x100;
    int16_t  ph_x100;
    float    turbidity_ntu;
    uint32_t battery_mv;
    uint32_t supply_mv;
    uint16_t rail12_mv;
    int32_t  pump_ma;
    uint16_t aerator_ma;
    int16_t  water_temp_x10;
    int32_t  inflow_kpa_x10;
    uint16_t light_lx;
    uint8_t  alarms;
};

extern struct readings hatchery;

#endif
