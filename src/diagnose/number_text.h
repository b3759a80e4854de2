// Numbers in sentences, in fixed notation whatever the locale: they end up in output files.
#ifndef STILLFIELD_DIAGNOSE_NUMBER_TEXT_H_
#define STILLFIELD_DIAGNOSE_NUMBER_TEXT_H_

#include <string>

namespace stillfield {

std::string fixed_text(double value, int decimals);

// A share as "12 %"; below a tenth with one digit after the point.
std::string percent_text(double share);

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_NUMBER_TEXT_H_
