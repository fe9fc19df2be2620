// The last words that went somewhere, any of them by its age.
#pragma once

#include <algorithm>
#include <cstdint>
#include <span>
#include <vector>

namespace halflsb {

/// Keeps `depth` words, all 0 at first. The words lie in a row, oldest first, and move to the front now and then.
template <class Value>
class History {
public:
    explicit History(std::size_t depth) : depth_(depth), line_(depth + room, Value{}), end_(depth) {}

    void reset() {
        std::fill(line_.begin(), line_.end(), Value{});
        end_ = depth_;
    }

    void push(Value value) {
        if (end_ == line_.size()) {
            std::copy(line_.end() - static_cast<std::ptrdiff_t>(depth_), line_.end(), line_.begin());
            end_ = depth_;
        }
        line_[end_++] = value;
    }

    /// 1: the newest. Up to depth.
    Value ago(std::size_t samples) const { return line_[end_ - samples]; }
    /// newest()[-k] is the one k before the newest.
    const Value* newest() const { return line_.data() + end_ - 1; }
    std::size_t depth() const { return depth_; }

    template <class Put>
    void for_each_newest_first(std::size_t count, Put put) const {
        for (std::size_t i = 1; i <= count; ++i) put(ago(i));
    }
    /// As for_each_newest_first gave them.
    void set(std::span<const Value> newest_first) {
        reset();
        for (std::size_t i = newest_first.size(); i-- > 0;) push(newest_first[i]);
    }

private:
    static constexpr std::size_t room = 4096;

    std::size_t depth_;
    std::vector<Value> line_;
    std::size_t end_;
};

}  // namespace halflsb
