#include "count/documents.h"

#include <algorithm>
#include <array>
#include <utility>

#include "base/huge_pages.h"
#include "base/status.h"

namespace phraseweld {
namespace {

constexpr uint64_t kNowhere = ~uint64_t{0};
// A scan gives pages back this often, so that the resident part of a mapped stream stays small.
constexpr uint64_t kReleaseEvery = uint64_t{1} << 19;

// What one part of the stream says of each item. The documents of a part are numbered from 1; the
// first may have begun in an earlier part and the last may go on in the next.
struct PartCounts {
  struct Item {
    uint64_t first = kNowhere;
    uint32_t documents = 0;
    uint32_t last_document = 0;
  };
  void See(size_t number, uint64_t at) {
    Item& item = items[number];
    if (item.last_document == document) return;
    if (item.last_document == 0) item.first = at;
    item.last_document = document;
    ++item.documents;
  }

  HugeVector<Item> items;
  uint32_t document = 1;          // the current one, in the end the last
  uint64_t first_end = kNowhere;  // where the part's first document ends
  bool ends_inside = false;
};

// Adds the parts up in their order; a document that lies in several parts counts once.
absl::StatusOr<SlotPlaces> Combine(Lanes& lanes, const std::vector<PartCounts>& parts,
                                   size_t items) {
  SlotPlaces places{std::vector<uint64_t>(items, 0), std::vector<uint64_t>(items, kNowhere)};
  const auto combine = [&](size_t i) {
    bool open = false;  // seen in the document that goes on
    bool goes_on = false;
    for (const PartCounts& part : parts) {
      const PartCounts::Item& item = part.items[i];
      const bool in_first = item.documents > 0 && item.first < part.first_end;
      places.documents[i] += item.documents;
      if (goes_on && open && in_first) --places.documents[i];
      if (places.first[i] == kNowhere) places.first[i] = item.first;
      const bool in_last = item.documents > 0 && item.last_document == part.document;
      if (!part.ends_inside) {
        open = false;
      } else if (part.first_end == kNowhere) {
        open = (goes_on && open) || in_last;
      } else {
        open = in_last;
      }
      goes_on = part.ends_inside;
    }
  };
  constexpr size_t kSlice = 8192;
  PW_RETURN_IF_ERROR(lanes.ForEach((items + kSlice - 1) / kSlice, [&](int, size_t slice) {
    const size_t end = std::min(items, (slice + 1) * kSlice);
    for (size_t i = slice * kSlice; i < end; ++i) combine(i);
    return absl::OkStatus();
  }));
  return places;
}

// Runs scan(part counts, chunk, begin, end) over the chunks of the parts of the stream, on all
// lanes.
template <typename ScanRange>
absl::StatusOr<SlotPlaces> CountInParts(Lanes& lanes, const StreamView& stream, size_t items,
                                        ScanRange&& scan) {
  // Parts are not equally hard, so that more of them share the work better; their counts take room.
  constexpr size_t kCountBytes = size_t{8} << 20;
  const auto lane_count = static_cast<size_t>(lanes.lanes());
  const size_t part_bytes = lane_count * items * sizeof(PartCounts::Item);
  const size_t parts_a_lane = std::clamp<size_t>(kCountBytes / (part_bytes + 1), 1, 4);
  std::vector<std::pair<uint64_t, uint64_t>> ranges;
  for (const auto& range : stream.Parts(lane_count * parts_a_lane)) {
    if (range.first < range.second) ranges.push_back(range);
  }
  std::vector<PartCounts> parts(ranges.size());
  PW_RETURN_IF_ERROR(lanes.ForEach(ranges.size(), [&](int, size_t i) {
    const auto [begin, end] = ranges[i];
    parts[i].items.resize(items);
    // Chunk by chunk, so that pages can be given back on the way.
    auto cut = std::lower_bound(stream.cuts.begin(), stream.cuts.end(), begin);
    uint64_t held = begin;
    for (; *cut < end; ++cut) {
      scan(&parts[i], static_cast<size_t>(cut - stream.cuts.begin()), *cut, *(cut + 1));
      if (*(cut + 1) - held >= kReleaseEvery) {
        stream.release(held, *(cut + 1));
        held = *(cut + 1);
      }
    }
    stream.release(held, end);
    parts[i].ends_inside = stream.entries[end - 1] != kDocumentEnd;
    if (!parts[i].ends_inside) --parts[i].document;
    return absl::OkStatus();
  }));
  return Combine(lanes, parts, items);
}

void EndDocument(PartCounts* part, uint64_t at) {
  if (part->first_end == kNowhere) part->first_end = at;
  ++part->document;
}

}  // namespace

absl::StatusOr<SlotPlaces> CountSlotDocuments(Lanes& lanes, const StreamView& stream,
                                              const SlotRules& rules, const SlotIndex& index,
                                              size_t size,
                                              std::vector<std::vector<FoundSlot>>* found) {
  if (found != nullptr) found->assign(stream.chunks(), {});
  return CountInParts(
      lanes, stream, size, [&](PartCounts* part, size_t chunk, uint64_t begin, uint64_t end) {
        std::vector<FoundSlot>* const list = found == nullptr ? nullptr : &(*found)[chunk];
        ScanListedSlots(
            stream.entries, begin, end, rules, index,
            [&](uint32_t place, const Slot&, uint64_t left_at, uint64_t right_at) {
              part->See(place, left_at);
              if (list == nullptr) return;
              list->push_back({left_at, static_cast<uint32_t>(right_at - left_at), place});
            },
            [&](uint64_t at) { EndDocument(part, at); },
            [part](uint32_t place) { __builtin_prefetch(&part->items[place], 1); });
      });
}

absl::StatusOr<std::vector<uint64_t>> CountTypeDocuments(Lanes& lanes, const StreamView& stream,
                                                         uint32_t word_types, size_t phrases) {
  // Sifted first, as ScanListedSlots() does, and for the same reasons.
  constexpr uint64_t kSift = 1024;
  constexpr size_t kAhead = 16;
  PW_ASSIGN_OR_RETURN(SlotPlaces places,
                      CountInParts(lanes, stream, phrases,
                                   [&](PartCounts* part, size_t, uint64_t begin, uint64_t end) {
                                     std::array<uint64_t, kSift> sifted;
                                     for (uint64_t base = begin; base < end; base += kSift) {
                                       const uint64_t sift_end = std::min(base + kSift, end);
                                       size_t found = 0;
                                       for (uint64_t at = base; at < sift_end; ++at) {
                                         const Entry entry = stream.entries[at];
                                         sifted[found] = at;
                                         found += ((entry & ~kInside) >= word_types) &
                                                  (entry < kFirstMark);
                                         found += entry == kDocumentEnd;
                                       }
                                       const auto phrase = [&](size_t i) {
                                         return (stream.entries[sifted[i]] & ~kInside) - word_types;
                                       };
                                       for (size_t i = 0; i < found; ++i) {
                                         if (i + kAhead < found && phrase(i + kAhead) < phrases) {
                                           __builtin_prefetch(&part->items[phrase(i + kAhead)], 1);
                                         }
                                         if (stream.entries[sifted[i]] == kDocumentEnd) {
                                           EndDocument(part, sifted[i]);
                                         } else {
                                           part->See(phrase(i), sifted[i]);
                                         }
                                       }
                                     }
                                   }));
  return std::move(places.documents);
}

}  // namespace phraseweld
