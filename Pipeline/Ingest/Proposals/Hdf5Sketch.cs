using System.Globalization;
using Pipeline.Hdf5;

namespace Pipeline.Ingest;

/// <summary>What an HDF5 file holds, and which layout it looks like.</summary>
static class Hdf5Sketch
{
    const int MostNodes = 4000, ShownNodes = 60, MostChannels = 16;

    public static FileSketch Of(string path)
    {
        using IHdf5File file = Hdf5Files.Open(path);
        IReadOnlyList<Hdf5Node> nodes = file.Describe(MostNodes);
        return new FileSketch([.. Tree(nodes)], Classes(file, nodes) ?? Matrix(file, nodes) ?? Groups(file, nodes) ?? Stamps(file, nodes));
    }

    static IEnumerable<string> Tree(IReadOnlyList<Hdf5Node> nodes)
    {
        foreach (Hdf5Node node in nodes.Take(ShownNodes))
        {
            string indent = new(' ', 2 * node.Path.Count(c => c == '/')), shape = node.Dimensions is null ? "" : $"  [{string.Join(", ", node.Dimensions)}] {node.Type}";
            string attributes = node.Attributes.Count == 0 ? "" : "  {" + string.Join(", ", node.Attributes.Take(8).Select(a => $"{a.Name} = {a.Text}")) + "}";
            yield return $"{indent}{node.Path}{shape}{attributes}";
        }
        if (nodes.Count > ShownNodes) yield return string.Create(CultureInfo.InvariantCulture, $"... and {nodes.Count - ShownNodes} more");
    }

    /// <summary>The largest dataset of two dimensions, or of three with few channels.</summary>
    static Proposal? Matrix(IHdf5File file, IReadOnlyList<Hdf5Node> nodes)
    {
        Hdf5Node? samples = nodes.Where(n => n.Dimensions?.Count is 2 or 3 && n.Elements is ElementKind.Integer or ElementKind.Real).MaxBy(n => n.Dimensions!.Aggregate(1L, (a, d) => a * d));
        if (samples is null) return null;
        bool channels = samples.Dimensions!.Count == 3;
        if (channels && samples.Dimensions[1] > MostChannels) return null;
        var (roles, place, labels) = Housekeeping(file, nodes, samples);
        (string? start, string? step) = (Named(samples, "START"), Named(samples, "DT", "STEP", "INTERVAL"));
        string? question = start is null || step is null ? "when does sampling start after the trigger, and how long is a sample? Put both under [samples]"
            : channels ? $"which of the channels 0 to {samples.Dimensions[1] - 1} is the detector? Put it under [samples] as channel" : null;
        string text = $"""
            format = "hdf5-matrix"

            [samples]
            dataset = {TomlText.Quote(samples.Path)}
            {(channels ? "channel = 0\n" : "")}start = {Stored(start, "\"0 s\"")}
            step = {Stored(step, "\"1 us\"")}
            {Factor(samples, "scale")}{Factor(samples, "offset")}refers_to = {Meaning(nodes)}


            """;
        return Finish(text, roles, labels("kind"), question, [$"{samples.Path}: samples [shot, {(channels ? "channel, " : "")}sample]"], place, labels("condition"));
    }

    /// <summary>A table with one row a shot, else datasets of one value a shot, else attributes of the samples.</summary>
    static (Roles Roles, string Place, Func<string, string[]?> Labels) Housekeeping(IHdf5File file, IReadOnlyList<Hdf5Node> nodes, Hdf5Node samples)
    {
        Hdf5Node[] perShot = [.. nodes.Where(n => n.Dimensions?.Count == 1 && n.Dimensions[0] == samples.Dimensions![0])];
        if (perShot.FirstOrDefault(n => n.Elements == ElementKind.Table) is { } table)
        {
            var fields = new Roles(table.Fields);
            return (fields, $"table = {TomlText.Quote(table.Path)}\n", role => fields.Of(role) is { } field ? file.ReadLabels(table.Path, field) : null);
        }
        var datasets = new Roles(perShot.Select(n => n.Path));
        var attributes = new Roles(samples.Attributes.Select(a => a.Name));
        return datasets.Of("kind") is null && !datasets.HasSwitches && (attributes.Of("kind") is not null || attributes.HasSwitches)
            ? (attributes, $"attributes_of = {TomlText.Quote(samples.Path)}\n", role => attributes.Of(role) is { } name ? file.ReadTextAttributes(samples.Path, name) : null)
            : (datasets, "", role => datasets.Of(role) is { } path ? file.ReadLabels(path) : null);
    }

    /// <summary>Many groups that differ in a number, each with one long dataset.</summary>
    static Proposal? Groups(IHdf5File file, IReadOnlyList<Hdf5Node> nodes)
    {
        var groups = nodes.Where(n => n.Dimensions is null && n.Path != "/" && !n.Path.Contains('/', StringComparison.Ordinal) && char.IsAsciiDigit(n.Path[^1])).ToList();
        Hdf5Node? samples = groups.Count < 2 ? null : nodes.FirstOrDefault(n => n.Path.StartsWith(groups[0].Path + "/", StringComparison.Ordinal) && n.Dimensions is [> 1]);
        if (samples is null) return null;
        string dataset = samples.Path[(groups[0].Path.Length + 1)..], pattern = groups[0].Path.TrimEnd([.. "0123456789"]) + "*";
        var roles = new Roles(groups[0].Attributes.Select(a => a.Name));
        string text = $"""
            format = "hdf5-groups"

            [samples]
            groups = {TomlText.Quote(pattern)}
            dataset = {TomlText.Quote(dataset)}
            start = "0 s"
            step = "1 us"
            samples = {samples.Dimensions![0]}
            refers_to = {Meaning(nodes)}


            """;
        string[]? kinds = roles.Of("kind") is { } kind ? [.. groups.Select(g => g.Attributes.FirstOrDefault(a => a.Name == kind).Text ?? "")] : null;
        return Finish(text, roles, kinds, "when does sampling start after the trigger, and how long is a sample? Put both under [samples]", [$"{pattern}/{dataset}: samples of one shot"]);
    }

    /// <summary>Groups named after a kind, with three dimensions of samples.</summary>
    static Proposal? Classes(IHdf5File file, IReadOnlyList<Hdf5Node> nodes)
    {
        Hdf5Node[] cubes = [.. nodes.Where(n => n.Dimensions?.Count == 3 && n.Elements == ElementKind.Real && Roles.KnownKinds.Any(k => n.Path.StartsWith(k, StringComparison.Ordinal)))];
        if (cubes.Length == 0) return null;
        string group = cubes[0].Path.Split('/')[0], kind = Roles.KnownKinds.First(k => group.StartsWith(k, StringComparison.Ordinal));
        int last = group.LastIndexOf('_');
        bool condition = last > kind.Length;
        string pattern = "{kind}" + (condition ? group[kind.Length..(last + 1)] + "{condition}" : group[kind.Length..]);
        Hdf5Node? times = nodes.FirstOrDefault(n => n.Dimensions is [var length] && length == cubes[0].Dimensions![2] && n.Path.Contains("time", StringComparison.OrdinalIgnoreCase));
        if (times is null) return null;
        var roles = new Roles(nodes.Where(n => n.Path.StartsWith(group + "/", StringComparison.Ordinal) && n.Dimensions?.Count == 2).Select(n => n.Path[(group.Length + 1)..]));
        string text = $$"""
            format = "hdf5-classes"

            [samples]
            groups = {{TomlText.Quote(pattern)}}
            dataset = {{TomlText.Quote(cubes[0].Path[(group.Length + 1)..])}}
            times = { dataset = {{TomlText.Quote(times.Path)}}, unit = "{{(times.Path.EndsWith("us", StringComparison.Ordinal) ? "us" : times.Path.EndsWith("ms", StringComparison.Ordinal) ? "ms" : "s")}}" }
            refers_to = {{Meaning(nodes)}}


            """;
        return new Proposal(text + roles.ShotsTable("{kind}", condition ? "{condition}" : null) + "\n" + Roles.Kinds([]).Table,
            [$"{pattern}/{cubes[0].Path[(group.Length + 1)..]}: samples [point, repeat, sample]", $"{times.Path}: sampling times", .. roles.Words], null);
    }

    /// <summary>Two long datasets of one length, of times and of whole numbers.</summary>
    static Proposal? Stamps(IHdf5File file, IReadOnlyList<Hdf5Node> nodes)
    {
        Hdf5Node? times = nodes.Where(n => n.Dimensions?.Count == 1 && n.Elements == ElementKind.Real && n.Path.Contains("time", StringComparison.OrdinalIgnoreCase)).MaxBy(n => n.Dimensions![0]);
        Hdf5Node? index = times is null ? null : nodes.FirstOrDefault(n => n.Dimensions is [var length] && length == times.Dimensions![0] && n.Elements == ElementKind.Integer);
        if (times is null || index is null) return null;
        double[] stamps = file.ReadNumbers(times.Path);
        const double Step = 10e-6;
        double start = Math.Floor(stamps.Min() / Step) * Step;
        var roles = new Roles(nodes.Where(n => n.Dimensions?.Count == 1 && n != times && n != index).Select(n => n.Path));
        string text = $$"""
            format = "hdf5-stamps"

            [samples]
            times = { dataset = {{TomlText.Quote(times.Path)}}, unit = "s" }
            shot_index = {{TomlText.Quote(index.Path)}}
            start = {{TomlText.Time(start)}}
            step = {{TomlText.Time(Step)}}
            samples = {{(int)Math.Floor((stamps.Max() - start) / Step) + 1}}


            """;
        return Finish(text, roles, roles.Of("kind") is { } kind ? file.ReadLabels(kind) : null, null, [$"{times.Path}: photon time stamps", $"{index.Path}: position of their shot"]);
    }

    static Proposal Finish(string text, Roles roles, string[]? kinds, string? question, string[] words, string place = "", string[]? conditions = null)
    {
        (string table, string? unknown) = Roles.Kinds(kinds ?? []);
        if (kinds is null && !roles.HasSwitches) unknown = "which dataset or attribute holds the kind of shot (probe and ablation on or off)? Put it under [shots] as kind";
        string shots = roles.ShotsTable().Replace("[shots]\n", "[shots]\n" + place, StringComparison.Ordinal);
        return new Proposal(text + shots + (roles.HasSwitches ? "" : "\n" + table) + Roles.Conditions(conditions ?? []), [.. words, .. roles.Words], question ?? unknown);
    }

    static string? Named(Hdf5Node node, params string[] parts) =>
        node.Attributes.Select(a => a.Name).FirstOrDefault(n => parts.Any(p => n.ToUpperInvariant().Contains(p, StringComparison.Ordinal)));

    static string Stored(string? attribute, string otherwise) =>
        attribute is null ? otherwise : $"{{ attribute = {TomlText.Quote(attribute)}, unit = \"{(attribute.EndsWith("_us", StringComparison.Ordinal) ? "us" : attribute.EndsWith("_ms", StringComparison.Ordinal) ? "ms" : "s")}\" }}";

    static string Factor(Hdf5Node node, string key) => node.Attributes.Any(a => a.Name == key) ? $"{key} = {{ attribute = \"{key}\" }}\n" : "";

    static string Meaning(IReadOnlyList<Hdf5Node> nodes) =>
        nodes[0].Attributes.Any(a => a.Text == "instant") ? "\"instant\"" : "\"bin start\"";
}
