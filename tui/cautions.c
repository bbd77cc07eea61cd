/* SPDX-License-Identifier: MIT */
#include "tui/cautions.h"

const char *const cautions[] = {
    "Sun: never point a telescope near the Sun. Keep dome and mirror covers closed while it is up; rows that "
    "say so are not to be slewed to.",
    "Mount: respect its cable, altitude, pier and past-meridian limits. A plan does not know how the mount "
    "stands.",
    "Weather: predictions know nothing of cloud, wind, dew or lightning. Close on rain, high humidity or "
    "strong wind, and never leave an open dome unattended.",
    "People: tell someone when you work alone at night, carry a light and a phone, and do not drive home "
    "tired after a full night.",
    "Dome: watch ladders, steps and moving domes in the dark.",
    "Data: ephemerides age. Look at the age, source, error and time standard of each one, and at what is "
    "marked as assumed.",
    "wane advises. The observatory's rules, local law and the people qualified for mount, dome and "
    "electrical work decide.",
};
const size_t caution_count = sizeof cautions / sizeof cautions[0];
