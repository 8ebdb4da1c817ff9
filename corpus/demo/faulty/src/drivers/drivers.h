#ifndef DRIVERS_H
#define DRIVERS_H

#include <stdint.h>

uint32_t tank_mm(uint16_t code);
uint16_t sump_cm(uint16_t code);

uint32_t oxygen_kpa_x100(void);
int16_t  ph_x100(void);
float    turbidity_ntu(void);

uint32_t battery_mv(void);
uint32_t supply_mv(void);
uint16_t rail12_mv(void);

int32_t  pump_ma(uint16_t code);
uint16_t aerator_ma(void);

int16_t  water_temp_x10(uint16_t code);
int32_t  inflow_kpa_x10(uint16_t code);
uint16_t light_lx(void);

#endif
