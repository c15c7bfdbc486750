using System.Globalization;
using Tomlyn.Parsing;
using Tomlyn.Syntax;

namespace Pipeline.Configuration;

/// <summary>A place in a configuration file.</summary>
/// <param name="File">Name relative to the configuration folder.</param>
/// <param name="Line">From 1.</param>
/// <param name="Column">From 1.</param>
readonly record struct TomlPlace(string File, int Line, int Column)
{
    public string At(string what) => string.Create(CultureInfo.InvariantCulture, $"{File}, line {Line}, column {Column}, {what}");
}

/// <summary>A value: string, long, double, bool, <see cref="TomlTable"/>, or a list of tables; with its place.</summary>
sealed record TomlValue(object Content, TomlPlace Place);

/// <summary>Reads a TOML file into tables that know their places.</summary>
static class TomlFile
{
    /// <exception cref="DataFaultException">Unreadable, or no valid TOML.</exception>
    public static TomlTable Read(string folder, string name)
    {
        string text;
        try { text = File.ReadAllText(Path.Combine(folder, name)); }
        catch (Exception e) when (e is IOException or UnauthorizedAccessException)
        {
            throw new DataFaultException(name, $"a file that cannot be read ({e.Message})", "a TOML file in the configuration folder", "create it, or name the folder with --config");
        }
        DocumentSyntax document = SyntaxParser.Parse(text, name);
        foreach (DiagnosticMessage message in document.Diagnostics)
            throw new DataFaultException(Place(name, message.Span).At("syntax"), message.Message, "valid TOML", "correct the line");
        var root = new TomlTable(new TomlPlace(name, 1, 1), "");
        Fill(root, document.KeyValues, name);
        foreach (TableSyntaxBase table in document.Tables) Fill(Open(root, table, name), table.Items, name);
        return root;
    }

    static TomlTable Open(TomlTable root, TableSyntaxBase table, string name)
    {
        string[] path = PathOf(table.Name!);
        TomlTable at = root;
        foreach (string part in path[..^1]) at = at.Child(part, Place(name, table.Span));
        return table is TableArraySyntax ? at.Append(path[^1], Place(name, table.Span)) : at.Child(path[^1], Place(name, table.Span));
    }

    static void Fill(TomlTable table, IEnumerable<KeyValueSyntax> items, string name)
    {
        foreach (KeyValueSyntax item in items)
        {
            string[] path = PathOf(item.Key!);
            TomlTable at = table;
            foreach (string part in path[..^1]) at = at.Child(part, Place(name, item.Key!.Span));
            at.Set(path[^1], new TomlValue(Content(item.Value!, at.PathOf(path[^1]), name), Place(name, item.Value!.Span)), Place(name, item.Key!.Span));
        }
    }

    static object Content(ValueSyntax value, string path, string name)
    {
        switch (value)
        {
            case StringValueSyntax text: return text.Value ?? "";
            case IntegerValueSyntax whole: return whole.Value;
            case FloatValueSyntax real: return real.Value;
            case BooleanValueSyntax flag: return flag.Value;
            case InlineTableSyntax inline:
                var table = new TomlTable(Place(name, inline.Span), path);
                Fill(table, inline.Items.Select(i => i.KeyValue!), name);
                return table;
            case ArraySyntax array when array.Items.All(i => i.Value is StringValueSyntax):
                return array.Items.Select(i => ((StringValueSyntax)i.Value!).Value ?? "").ToArray();
            default:
                throw new DataFaultException(Place(name, value.Span).At(path), value.Kind.ToString(), "a string, number, true, false, table or list of strings", "write it in another way");
        }
    }

    static string[] PathOf(KeySyntax key) => [Word(key.Key!), .. key.DotKeys.Select(d => Word(d.Key!))];

    static string Word(BareKeyOrStringValueSyntax word) => word switch
    {
        BareKeySyntax bare => bare.Key?.Text ?? "",
        StringValueSyntax quoted => quoted.Value ?? "",
        _ => word.ToString().Trim(),
    };

    static TomlPlace Place(string name, SourceSpan span) => new(name, span.Start.Line + 1, span.Start.Column + 1);
}
