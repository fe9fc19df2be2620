// Little-endian fields of a message body, written and read in order.
#pragma once

#include <cstddef>
#include <cstdint>
#include <span>
#include <string>
#include <string_view>
#include <type_traits>
#include <vector>

namespace halflsb {

class BodyWriter {
public:
    explicit BodyWriter(std::vector<std::byte>& out) : out_(out) {}

    template <class Integer>
    BodyWriter& integer(Integer value, std::size_t bytes = sizeof(Integer)) {
        const auto bits = static_cast<std::uint64_t>(static_cast<std::make_unsigned_t<Integer>>(value));
        for (std::size_t k = 0; k < bytes; ++k) out_.push_back(static_cast<std::byte>((bits >> (8 * k)) & 0xFF));
        return *this;
    }
    BodyWriter& bytes(std::span<const std::byte> bytes) {
        out_.insert(out_.end(), bytes.begin(), bytes.end());
        return *this;
    }
    /// Preceded by its length in one byte.
    BodyWriter& counted(std::span<const std::byte> content) {
        return integer(static_cast<std::uint8_t>(content.size())).bytes(content);
    }
    BodyWriter& text(std::string_view content) {
        return counted(std::as_bytes(std::span(content.data(), content.size())));
    }

private:
    std::vector<std::byte>& out_;
};

/// After a field that is not there, every later one is zero and ended_well() false.
class BodyReader {
public:
    explicit BodyReader(std::span<const std::byte> body) : left_(body) {}

    template <class Integer>
    BodyReader& integer(Integer& value, std::size_t bytes = sizeof(Integer)) {
        std::uint64_t bits = 0;
        const std::span<const std::byte> field = take(bytes);
        for (std::size_t k = 0; k < field.size(); ++k) bits |= std::to_integer<std::uint64_t>(field[k]) << (8 * k);
        value = static_cast<Integer>(static_cast<std::make_unsigned_t<Integer>>(bits));
        return *this;
    }
    BodyReader& rest(std::span<const std::byte>& bytes) {
        bytes = take(left_.size());
        return *this;
    }
    BodyReader& counted(std::span<const std::byte>& bytes, std::size_t largest) {
        std::uint8_t size = 0;
        integer(size);
        if (size > largest) failed_ = true;
        bytes = take(size);
        return *this;
    }
    BodyReader& text(std::string& content, std::size_t largest) {
        std::span<const std::byte> bytes;
        counted(bytes, largest);
        content.clear();
        for (const std::byte byte : bytes) content.push_back(static_cast<char>(byte));
        return *this;
    }

    std::size_t bytes_left() const { return left_.size(); }
    bool ended_well() const { return !failed_ && left_.empty(); }

private:
    std::span<const std::byte> take(std::size_t count) {
        if (failed_ || count > left_.size()) {
            failed_ = true;
            return {};
        }
        const std::span<const std::byte> taken = left_.first(count);
        left_ = left_.subspan(count);
        return taken;
    }

    std::span<const std::byte> left_;
    bool failed_ = false;
};

}  // namespace halflsb
