#include "io/hdf5/output.hpp"

#include <algorithm>

namespace farsum::io::hdf5 {
namespace {

constexpr ErrorCode kWriteFault = ErrorCode::file_not_writable;

Handle create_file(const std::string& path) {
  const Handle creation(H5Pcreate(H5P_FILE_CREATE), H5Pclose);
  H5Pset_obj_track_times(creation.get(), false);  // the root group keeps times of its own
  const Handle access(H5Pcreate(H5P_FILE_ACCESS), H5Pclose);
  H5Pset_fclose_degree(access.get(), H5F_CLOSE_SEMI);
  H5Pset_libver_bounds(access.get(), H5F_LIBVER_V18, H5F_LIBVER_V110);
  return own(H5Fcreate(path.c_str(), H5F_ACC_EXCL, creation.get(), access.get()), H5Fclose, kWriteFault, path, {},
             "the file cannot be created");
}

hid_t file_type(Stored stored) {
  switch (stored) {
    case Stored::int64:
      return H5T_STD_I64LE;
    case Stored::uint64:
      return H5T_STD_U64LE;
    default:
      return H5T_IEEE_F64LE;
  }
}

/// Properties of a data set: no time stamps (equal inputs give equal bytes), no fill values, integers packed.
Handle column_properties(Stored stored, std::uint64_t size) {
  Handle list(H5Pcreate(H5P_DATASET_CREATE), H5Pclose);
  H5Pset_obj_track_times(list.get(), false);
  H5Pset_fill_time(list.get(), H5D_FILL_TIME_NEVER);
  if (stored != Stored::float64 && size > 0) {
    const hsize_t chunk = std::min<hsize_t>(size, kSlab);
    H5Pset_chunk(list.get(), 1, &chunk);
    H5Pset_shuffle(list.get());
    H5Pset_deflate(list.get(), 1);
    H5Pset_fletcher32(list.get());
  }
  return list;
}

Handle create_dataset(hid_t parent, const std::string& file, const std::string& object, const std::string& name, Stored stored,
                      std::uint64_t size) {
  const hsize_t extent = size;
  const Handle space(H5Screate_simple(1, &extent, nullptr), H5Sclose);
  const Handle list = column_properties(stored, size);
  return own(H5Dcreate2(parent, name.c_str(), file_type(stored), space.get(), H5P_DEFAULT, list.get(), H5P_DEFAULT), H5Dclose,
             kWriteFault, file, object, "the data set cannot be created");
}

}  // namespace

void Node::write_attribute(const char* name, hid_t type, hid_t memory_type, hid_t space, const void* value) const {
  const std::string item = object_ + "@" + name;
  Handle attribute = own(H5Acreate2(id(), name, type, space, H5P_DEFAULT, H5P_DEFAULT), H5Aclose, kWriteFault, file_, item,
                         "the attribute cannot be created");
  check(H5Awrite(attribute.get(), memory_type, value), kWriteFault, file_, item, "the attribute cannot be written");
  if (!attribute.close()) fail(kWriteFault, file_, item, "the attribute cannot be written");
}

void Node::write_scalar(const char* name, hid_t type, hid_t memory_type, const void* value) const {
  const Handle space(H5Screate(H5S_SCALAR), H5Sclose);
  write_attribute(name, type, memory_type, space.get(), value);
}

void Node::write_list(const char* name, hid_t type, hid_t memory_type, const void* values, std::size_t count) const {
  const hsize_t extent = count;
  const Handle space(H5Screate_simple(1, &extent, nullptr), H5Sclose);
  write_attribute(name, type, memory_type, space.get(), values);
}

void Node::set_text(const char* name, std::string_view value) const {
  const std::string text(value.empty() ? std::string_view("", 1) : value);
  const Handle type(H5Tcopy(H5T_C_S1), H5Tclose);
  H5Tset_size(type.get(), text.size());
  H5Tset_strpad(type.get(), H5T_STR_NULLPAD);
  const bool ascii =
      std::all_of(text.begin(), text.end(), [](char letter) { return static_cast<unsigned char>(letter) < 128; });
  if (!ascii) H5Tset_cset(type.get(), H5T_CSET_UTF8);
  const Handle space(H5Screate(H5S_SCALAR), H5Sclose);
  write_attribute(name, type.get(), type.get(), space.get(), text.data());
}

void Node::set_number(const char* name, double value) const {
  write_scalar(name, H5T_IEEE_F64LE, H5T_NATIVE_DOUBLE, &value);
}
void Node::set_integer(const char* name, std::int64_t value) const {
  write_scalar(name, H5T_STD_I64LE, H5T_NATIVE_INT64, &value);
}
void Node::set_u32(const char* name, std::uint32_t value) const {
  write_scalar(name, H5T_STD_U32LE, H5T_NATIVE_UINT32, &value);
}
void Node::set_numbers(const char* name, const double* values, std::size_t count) const {
  write_list(name, H5T_IEEE_F64LE, H5T_NATIVE_DOUBLE, values, count);
}
void Node::set_u64s(const char* name, const std::vector<std::uint64_t>& values) const {
  write_list(name, H5T_STD_U64LE, H5T_NATIVE_UINT64, values.data(), values.size());
}

void Node::close() {
  if (!handle_.close()) fail(kWriteFault, file_, object_, "the data cannot be written");
}

ColumnOutput::ColumnOutput(hid_t parent, const std::string& file, const std::string& object, const std::string& name,
                           Stored stored, std::uint64_t size)
    : Node(create_dataset(parent, file, object, name, stored, size), file, object), size_(size) {}

void ColumnOutput::append(const double* values, std::size_t count) {
  append_as(H5T_NATIVE_DOUBLE, values, count);
}
void ColumnOutput::append(const std::int64_t* values, std::size_t count) {
  append_as(H5T_NATIVE_INT64, values, count);
}
void ColumnOutput::append(const std::uint64_t* values, std::size_t count) {
  append_as(H5T_NATIVE_UINT64, values, count);
}

void ColumnOutput::append_as(hid_t type, const void* values, std::size_t count) {
  if (count == 0) return;
  const hsize_t offset = written_, extent = count;
  const Handle memory(H5Screate_simple(1, &extent, nullptr), H5Sclose);
  const Handle space(H5Dget_space(id()), H5Sclose);
  check(H5Sselect_hyperslab(space.get(), H5S_SELECT_SET, &offset, nullptr, &extent, nullptr), kWriteFault, file_, object_,
        "the rows cannot be selected");
  check(H5Dwrite(id(), type, memory.get(), space.get(), H5P_DEFAULT, values), kWriteFault, file_, object_,
        "the data cannot be written");
  written_ += count;
}

void ColumnOutput::finish() {
  if (written_ != size_) throw Error(ErrorCode::internal, "fewer rows were written than promised", file_, object_, {});
  close();
}

Output::Output(const std::string& path) : path_(path), file_(create_file(path)) {}

Node Output::root() const {
  return Node(own(H5Gopen2(file_.get(), "/", H5P_DEFAULT), H5Gclose, kWriteFault, path_, "/", "the group cannot be opened"),
              path_, "/");
}

Node Output::create_group(const std::string& object) const {
  const Handle list(H5Pcreate(H5P_GROUP_CREATE), H5Pclose);
  H5Pset_obj_track_times(list.get(), false);
  return Node(own(H5Gcreate2(file_.get(), object.c_str(), H5P_DEFAULT, list.get(), H5P_DEFAULT), H5Gclose, kWriteFault, path_,
                  object, "the group cannot be created"),
              path_, object);
}

ColumnOutput Output::create_column(const std::string& object, Stored stored, std::uint64_t size) const {
  return ColumnOutput(file_.get(), path_, object, object, stored, size);
}

void Output::close() {
  check(H5Fflush(file_.get(), H5F_SCOPE_GLOBAL), kWriteFault, path_, {}, "the file cannot be written");
  if (!file_.close()) fail(kWriteFault, path_, {}, "the file cannot be closed");
}

}  // namespace farsum::io::hdf5
