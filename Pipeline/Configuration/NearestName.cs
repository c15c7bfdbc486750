namespace Pipeline.Configuration;

/// <summary>The name that was probably meant.</summary>
static class NearestName
{
    /// <summary>"did you mean ...?", or a list of what there is.</summary>
    public static string Remedy(string typed, IEnumerable<string> valid)
    {
        string[] names = [.. valid];
        string? best = names.MinBy(n => Distance(typed, n));
        return best is not null && Distance(typed, best) <= Math.Max(2, typed.Length / 3)
            ? $"did you mean \"{best}\"?" : $"use one of: {string.Join(", ", names)}";
    }

    /// <summary>Insertions, deletions and substitutions between two words (Levenshtein 1966).</summary>
    static int Distance(string a, string b)
    {
        int[] row = [.. Enumerable.Range(0, b.Length + 1)];
        for (int i = 1; i <= a.Length; i++)
        {
            (int diagonal, row[0]) = (row[0], i);
            for (int j = 1; j <= b.Length; j++)
            {
                int next = Math.Min(Math.Min(row[j], row[j - 1]) + 1, diagonal + (a[i - 1] == b[j - 1] ? 0 : 1));
                (diagonal, row[j]) = (row[j], next);
            }
        }
        return row[^1];
    }
}
