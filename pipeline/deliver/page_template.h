#ifndef PHRASEWELD_DELIVER_PAGE_TEMPLATE_H_
#define PHRASEWELD_DELIVER_PAGE_TEMPLATE_H_

#include <string_view>

namespace phraseweld {

// A page before and behind its data, made by page/embed.cmake from the files beside it: style and
// script are in place and their hashes in the content security policy.
extern const std::string_view kPageHead;
extern const std::string_view kPageTail;
extern const std::string_view kComparePageHead;
extern const std::string_view kComparePageTail;

}  // namespace phraseweld

#endif  // PHRASEWELD_DELIVER_PAGE_TEMPLATE_H_
