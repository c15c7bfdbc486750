using System.Text;
using static Pipeline.Hdf5.Library.Declarations;

namespace Pipeline.Hdf5.Library;

/// <summary>Walks paths link by link, so that a loop of soft links ends and an external link is seen before it is followed.</summary>
/// <param name="library">The library.</param>
/// <param name="file">Identifier of the open file.</param>
/// <param name="name">Its name, for faults.</param>
/// <param name="externalLinks">Whether links into other files may be followed.</param>
sealed unsafe class NativeLinks(LoadedLibrary library, long file, string name, bool externalLinks)
{
    const int MostSteps = 64, Hard = 0, Soft = 1, External = 64;

    /// <summary>The group or dataset at a path; null where there is none.</summary>
    public NativeId? Open(string path) => Open(path, out _);

    /// <param name="path">Of the thing.</param>
    /// <param name="hard">The same by hard links of this file alone; null where there is none.</param>
    public NativeId? Open(string path, out string? hard)
    {
        hard = "";
        var rest = new LinkedList<string>(path.Split('/', StringSplitOptions.RemoveEmptyEntries));
        NativeId at = Root();
        try
        {
            for (int steps = 0; rest.First is { } first; steps++)
            {
                if (steps >= MostSteps) throw new DataFaultException($"{name}, {path}", $"more than {MostSteps} links on the way", "a short path without loops", "repair the soft links, or name the data by its own path");
                rest.RemoveFirst();
                if (first.Value == ".") continue;
                if (H5Iget_type(at) != GroupType || library.Link(at, first.Value) is not { } link)
                {
                    _ = H5Eclear2(0);
                    at.Dispose();
                    return null;
                }
                if (link.Type == Soft)
                {
                    string target = Target(at, first.Value, link);
                    foreach (string part in target.Split('/', StringSplitOptions.RemoveEmptyEntries).Reverse()) rest.AddFirst(part);
                    if (target.StartsWith('/'))
                    {
                        Replace(ref at, Root());
                        if (hard is not null) hard = "";
                    }
                    continue;
                }
                if (link.Type != Hard && !(link.Type == External && externalLinks)) throw Refuse(path, link.Type, Target(at, first.Value, link));
                hard = link.Type == External || hard is null ? null : $"{hard}/{first.Value}";
                Replace(ref at, NativeId.Thing(H5Oopen(at, first.Value, 0)));
            }
            return at;
        }
        catch
        {
            at.Dispose();
            throw;
        }
    }

    /// <summary>Names of all links in a group, in ordinal order.</summary>
    public static IReadOnlyList<string> Names(long group)
    {
        LibraryFailure.Check(H5Gget_info(group, out GroupInfo info));
        var names = new List<string>();
        for (ulong n = 0; n < info.Links; n++)
        {
            nint length = H5Lget_name_by_idx(group, ".", 0, 0, n, null, 0, 0);
            if (length < 0) throw new LibraryFailure(LibraryLoader.LastError());
            byte[] text = new byte[length + 1];
            fixed (byte* at = text) _ = H5Lget_name_by_idx(group, ".", 0, 0, n, at, (nuint)text.Length, 0);
            names.Add(Encoding.UTF8.GetString(text, 0, (int)length));
        }
        names.Sort(StringComparer.Ordinal);
        return names;
    }

    public const int GroupType = 2, DatasetType = 5;

    NativeId Root() => NativeId.Thing(H5Oopen(file, "/", 0));

    static void Replace(ref NativeId at, NativeId next)
    {
        at.Dispose();
        at = next;
    }

    static string Target(long group, string link, LinkInfo info)
    {
        byte[] value = new byte[info.AddressOrSize + 1];
        fixed (byte* at = value) LibraryFailure.Check(H5Lget_val(group, link, at, (nuint)info.AddressOrSize, 0));
        // an external link holds a byte of flags, the file and the path
        return info.Type == Soft ? Encoding.UTF8.GetString(value).TrimEnd('\0') : string.Join(", ", Encoding.UTF8.GetString(value, 1, value.Length - 1).Split('\0', StringSplitOptions.RemoveEmptyEntries));
    }

    DataFaultException Refuse(string path, int type, string target) => type == External
        ? new($"{name}, {path}", $"a link into another file ({target})", "data in this file", "copy the data into the file, or set external_links = true in the layout")
        : new($"{name}, {path}", $"a link of unknown kind {type}", "a hard or soft link", "copy the data into the file");
}
