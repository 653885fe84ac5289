namespace TmLab.Numerics.LinearAlgebra;

/// <summary>
/// A sparse symmetric positive-definite system A x = b, filled entry by entry, as normal equations are. Unknowns are renumbered
/// by the reverse Cuthill–McKee order (Cuthill &amp; McKee 1969; George &amp; Liu, Computer Solution of Large Sparse Positive Definite
/// Systems (1981), ch. 4), so that the factor is a narrow band whatever the order in which the caller numbers them.
/// </summary>
public sealed class SparseNormalEquations
{
    private readonly Dictionary<int, double>[] _rows;

    /// <summary>Starts with A = 0.</summary>
    /// <param name="size">Number of unknowns.</param>
    public SparseNormalEquations(int size)
    {
        Preconditions.InRange(size, 1, int.MaxValue);
        _rows = [.. Enumerable.Range(0, size).Select(_ => new Dictionary<int, double>(4))];
    }

    /// <summary>Number of unknowns.</summary>
    public int Size => _rows.Length;

    /// <summary>A[i, j] += value, and A[j, i] with it.</summary>
    public void Add(int i, int j, double value)
    {
        AddOne(i, j, value);
        if (i != j)
        {
            AddOne(j, i, value);
        }
    }

    /// <summary>Factors A.</summary>
    /// <exception cref="LinearAlgebraException">A is not positive definite.</exception>
    public BandedCholesky Factor()
    {
        int[] order = ReverseCuthillMcKee();
        var place = new int[Size];
        for (int k = 0; k < Size; k++)
        {
            place[order[k]] = k;
        }

        int width = 0;
        for (int i = 0; i < Size; i++)
        {
            foreach (int j in _rows[i].Keys)
            {
                width = Math.Max(width, Math.Abs(place[i] - place[j]));
            }
        }

        var factor = new BandedCholesky(place, width);
        for (int i = 0; i < Size; i++)
        {
            foreach ((int j, double value) in _rows[i])
            {
                factor.Set(place[i], place[j], value);
            }
        }

        factor.Decompose();
        return factor;
    }

    private void AddOne(int i, int j, double value)
    {
        _rows[i].TryGetValue(j, out double sum);
        _rows[i][j] = sum + value;
    }

    private int[] ReverseCuthillMcKee()
    {
        var order = new List<int>(Size);
        var seen = new bool[Size];
        foreach (int start in Enumerable.Range(0, Size).OrderBy(i => _rows[i].Count))
        {
            if (!seen[start])
            {
                Spread(Peripheral(start), seen, order);
            }
        }

        order.Reverse();
        return [.. order];
    }

    // The end of a longest breadth-first search is a good place to start: twice is enough.
    private int Peripheral(int start)
    {
        for (int round = 0; round < 2; round++)
        {
            var visited = new List<int>();
            Spread(start, new bool[Size], visited);
            start = visited[^1];
        }

        return start;
    }

    private void Spread(int start, bool[] seen, List<int> order)
    {
        int next = order.Count;
        seen[start] = true;
        order.Add(start);
        for (; next < order.Count; next++)
        {
            foreach (int neighbour in _rows[order[next]].Keys.Where(j => !seen[j]).OrderBy(j => _rows[j].Count).ThenBy(j => j).ToArray())
            {
                seen[neighbour] = true;
                order.Add(neighbour);
            }
        }
    }
}
