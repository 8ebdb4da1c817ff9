#include "main.h"
#include "adc.h"

extern ADC_HandleTypeDef hadc1;

uint32_t battery_mv;

void Battery_Task(void)
{
    uint32_t raw = 0;

    HAL_ADC_Start(&hadc1);
    if (HAL_ADC_PollForConversion(&hadc1, 10) == HAL_OK) {
        raw = HAL_ADC_GetValue(&hadc1);
        battery_mv = raw * 3300 * 11 / 4095;
    }
    HAL_ADC_Stop(&hadc1);
}
