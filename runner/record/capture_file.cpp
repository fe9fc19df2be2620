#include "runner/record/capture_file.hpp"

#include <algorithm>

namespace halflsb {

namespace {

std::string described(NpyType type, std::int64_t channels) {
    return "elements of type " + std::string(descriptor_of(type)) + " in " + std::to_string(channels) +
           (channels == 1 ? " channel" : " channels");
}

}  // namespace

Outcome<CaptureFile> CaptureFile::open(const Files& files, const std::string& path, const std::string& shown,
                                       const SampleFormat& format, int channels) {
    const auto refused = [&](std::string problem) {
        return Error{ErrorKind::input, shown, std::move(problem), "is it the file that the run made?"};
    };
    auto file = files.open_input(path);
    if (!file) return file.error();
    const std::int64_t size = (*file)->size_bytes();
    std::vector<std::byte> front(
        static_cast<std::size_t>(std::min<std::int64_t>(size, static_cast<std::int64_t>(npy_longest_header_bytes))));
    if (auto read = (*file)->read(0, front); !read) return read.error();
    const auto header = parse_npy_header(front);
    if (!header) return refused(header.error().place + ": " + header.error().problem);
    const NpyType wanted = npy_type_of(format);
    if (header->type != wanted || header->channels != channels) {
        return refused("it holds " + described(header->type, header->channels) + ", " + text_of(format) + " needs " +
                       described(wanted, channels));
    }
    // The header's count came from outside: compared by division, so that nothing can overflow.
    const std::int64_t row_bytes = static_cast<std::int64_t>(bytes_of(wanted)) * channels;
    const std::int64_t data_bytes = size - static_cast<std::int64_t>(header->data_offset);
    if (data_bytes < 0 || data_bytes % row_bytes != 0 || data_bytes / row_bytes != header->count) {
        return refused("its header states " + std::to_string(header->count) + " samples, the file holds " +
                       std::to_string(std::max<std::int64_t>(0, data_bytes) / row_bytes));
    }
    CaptureFile capture(std::move(*file), shown, format, channels);
    capture.samples_ = header->count;
    capture.data_offset_ = header->data_offset;
    return capture;
}

Outcome<void> CaptureFile::read(std::int64_t first_index, std::span<Code> codes) {
    const auto instants = static_cast<std::int64_t>(codes.size()) / channels_;
    if (first_index < 0 || instants > samples_ - first_index) {
        return Error{ErrorKind::defect, shown_, "samples were asked for that it does not hold", ""};
    }
    const std::size_t element = bytes_of(npy_type_of(format_));
    bytes_.resize(codes.size() * element);
    const auto offset =
        static_cast<std::int64_t>(data_offset_) + first_index * channels_ * static_cast<std::int64_t>(element);
    if (auto read = file_->read(offset, bytes_); !read) return read;
    from_npy_bytes(format_, bytes_, codes);
    return {};
}

}  // namespace halflsb
