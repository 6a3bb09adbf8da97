#ifndef PHRASEWELD_WORDS_ICU_ERROR_H_
#define PHRASEWELD_WORDS_ICU_ERROR_H_

#include <unicode/utypes.h>

#include <stdexcept>

namespace phraseweld {

// ICU's root rules and tables are part of its data library: a failure is a broken installation or
// the end of memory, and there is no answer to give.
inline void RequireIcu(UErrorCode error) {
  if (U_FAILURE(error)) throw std::runtime_error(u_errorName(error));
}

}  // namespace phraseweld

#endif  // PHRASEWELD_WORDS_ICU_ERROR_H_
