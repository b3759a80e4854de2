// What a failed check means, in words for the reader of a result.
#ifndef STILLFIELD_DIAGNOSE_CHECK_SENTENCES_H_
#define STILLFIELD_DIAGNOSE_CHECK_SENTENCES_H_

#include <string>

#include "diagnose/model_check.h"

namespace stillfield {

// Of a check of that name; empty for a name it does not know.
std::string check_sentence(const ModelCheck& check);

}  // namespace stillfield

#endif  // STILLFIELD_DIAGNOSE_CHECK_SENTENCES_H_
