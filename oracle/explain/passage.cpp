#include "oracle/explain/passage.hpp"

#include <limits>

namespace halflsb {

bool has_events(PassageKind kind) {
    return kind != PassageKind::plain && kind != PassageKind::late && kind != PassageKind::each_nth &&
           kind != PassageKind::twice;
}

bool has_blocks(PassageKind kind) {
    return kind == PassageKind::block_repeated || kind == PassageKind::output_block_repeated ||
           kind == PassageKind::block_skipped;
}

std::int64_t next_event(const Passage& passage, std::int64_t index) {
    if (!has_events(passage.kind)) return std::numeric_limits<std::int64_t>::max();
    if (index <= passage.first) return passage.first;
    if (passage.period <= 0) return std::numeric_limits<std::int64_t>::max();
    const std::int64_t behind = (index - passage.first + passage.period - 1) / passage.period;
    return passage.first + behind * passage.period;
}

}  // namespace halflsb
