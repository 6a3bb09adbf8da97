#ifndef PHRASEWELD_BASE_VERSION_H_
#define PHRASEWELD_BASE_VERSION_H_

#include <string_view>

namespace phraseweld {

// The same as in CMakeLists.txt, which a test sees to.
inline constexpr std::string_view kVersion = "0.1.0";

}  // namespace phraseweld

#endif  // PHRASEWELD_BASE_VERSION_H_
